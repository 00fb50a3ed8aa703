"""Audio without a sound card for the tests: a JACK server, clients that feed and capture, the program under test."""
