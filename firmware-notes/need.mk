# $(call need,TOOL) and $(call need_file,FILE,PACKAGE) in front of "&&": true when it
# is there. When it is not, the rest of the line is skipped and that is said; with
# STRICT=1 it is an error.
need      = { command -v $(1) >/dev/null 2>&1 || { echo "skipped: $(1) is not installed"; exit $(if $(STRICT),1,0); }; }
need_file = { [ -e $(1) ] || { echo "skipped: $(1) is missing (install $(2))"; exit $(if $(STRICT),1,0); }; }
