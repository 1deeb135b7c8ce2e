"""What can hurt when salts dissolve; printed wherever the tool speaks of runs to be made."""

CAUTIONS: tuple[str, ...] = (
    "Put the solid into the water, never the water onto the solid, and make a small trial first.",
    "Some salts heat strongly as they dissolve: NaOH to 5 mol/kg warms its solution by well over 40 K, AlCl3 to "
    "1 mol/kg by over 70 K while it gives off HCl gas. Hot solutions splash.",
    "Wear eye protection. Broken ampoules are broken glass.",
    "No acid near cyanides, sulfides or azides. Keep oxidisers away from organic matter. Collect heavy-metal waste.",
    "Read the supplier's safety data sheet of every salt before the first run.",
    "The local rules, and the person responsible for the laboratory, come before anything printed here.",
)
