"""Sound designs and the single faults that a review must find in them.

`board` holds a design as a table, `edits` what can go wrong with it, `writers` puts it into either format;
`catalogue` lists the sound designs and the faults, `harmless` the changes that must raise no alarm,
`explained` what a review may still leave to a person.

`pytest tests/faults` ends with recall and false alarms by topic.
"""
