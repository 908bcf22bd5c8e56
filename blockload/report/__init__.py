"""Tables, results, pictures and the page: what a person or a program reads of a run."""
