"""What rests on readings: fits, rival laws, rates beyond those tested."""
