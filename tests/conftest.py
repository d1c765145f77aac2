"""Makes the helpers beside this file (`trains`) importable from every folder of tests."""
