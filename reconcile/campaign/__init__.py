"""A laboratory's folder, checked: tables in the glossary's units, and every problem at once."""

from reconcile.campaign.problems import CampaignError, Problem
from reconcile.campaign.reading import read_campaign
from reconcile.campaign.tables import (
    ENTHALPY_OF_SOLUTION,
    FORMATION_ENTHALPY,
    Campaign,
    Key,
    LabReference,
    Quantity,
    Remark,
    Table,
)
from reconcile.campaign.writing import write_campaign

__all__ = [
    "ENTHALPY_OF_SOLUTION", "FORMATION_ENTHALPY", "Campaign", "CampaignError", "Key", "LabReference", "Problem",
    "Quantity", "Remark", "Table", "read_campaign", "write_campaign",
]  # fmt: skip
