"""The machine between hand and load: lever, linkage, friction, handle path, zones."""
