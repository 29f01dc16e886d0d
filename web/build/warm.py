import importlib, sys, gc, json, zipimport
def main():
    for name in sorted(zipimport.zipimporter("/lib/python313.zip")._get_files()):
        if name.endswith(".pyc") and not name.endswith("__main__.pyc"):
            importlib.import_module(name[:-4].removesuffix("/__init__").replace("/", "."))
    from pycore.api import handle
    def ask(do, **given):
        return json.loads(handle(json.dumps({"format": "wedgewright.request/1", "do": do, **given})))
    for _ in range(3):
        job = ask("demonstration")["job"]
        ask("report", job=job, scenes=True, text=True)
main()
del main
gc.collect()
gc.freeze()
gc.set_threshold(50_000, 50, 100)
