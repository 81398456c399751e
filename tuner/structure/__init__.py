"""The only room that touches the chemistry toolkit: reads, prepares, takes apart, puts together and draws
structures.

`molecule` reads; `cores` and `scaffolds` prepare cores; `dissect` takes molecules apart; `assemble` puts
patterns together; `groups` spells substituents; `depict` and `sdf` show. `records` alone may be imported
without the toolkit.
"""
