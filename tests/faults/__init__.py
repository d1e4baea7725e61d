"""Sound designs and the single faults that a review must find in them.

`board` holds a design as a table, `edits` what can go wrong with it, `writers` puts it into either format;
`sound` lists the designs, `catalogue` the faults, `explained` what a review may still leave to a person.
"""
