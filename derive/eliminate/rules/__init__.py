"""One file per step rule: what the step's equation is, and the certificate that it follows."""
