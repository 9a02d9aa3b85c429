"""The sheet functions and their parameters as the interfaces (IDL), the component (C++) and the texts for the Function
Wizard (XCU) name them. Read without an office."""

import functools
import pathlib
import re
import xml.etree.ElementTree as ElementTree

TOP = pathlib.Path(__file__).resolve().parents[2]
OOR = "{http://openoffice.org/2001/registry}"

# Names that documents hold: they may be added to, never changed or taken away.
FUNCTIONS = ["VIF", "CONDITION", "DEPENDENCIES", "ESTIMATES", "FITQUALITY", "LEDGER", "GROUPS", "PREDICT", "ROWSNEEDED",
             "FROMCORRELATIONS"]
SERVICE = "UNPLY"


def without_comments(text):
    return re.sub(r"/\*.*?\*/|//[^\n]*", "", text, flags=re.S)


@functools.cache
def functions_of_idl():
    """Function -> [(parameter, type without its modules)], from every interface of sheet functions."""
    functions = {}
    for path in sorted((TOP / "idl/unply").glob("X*Functions.idl")):
        for name, parameters in re.findall(r">\s*>\s*(\w+)\((.*?)\);", without_comments(path.read_text()), flags=re.S):
            functions[name] = [(words.split()[-1], words.split()[-2].split("::")[-1])
                               for words in parameters.split(",")]
    return functions


@functools.cache
def functions_of_component():
    """Function -> [parameter], from the methods that answer."""
    text = without_comments((TOP / "extension/functions/sheet_functions.cpp").read_text())
    return {name: [words.split()[-1].lstrip("&*") for words in parameters.split(",")]
            for name, parameters in re.findall(r"AnyCells SAL_CALL (\w+)\((.*?)\) override", text, flags=re.S)}


@functools.cache
def service_node():
    root = ElementTree.parse(TOP / "extension/config/CalcAddIns.xcu").getroot()
    services = root.findall("node/node")
    assert len(services) == 1, "one service holds all sheet functions"
    return services[0]


def value(node, name):
    return node.find(f"prop[@{OOR}name='{name}']/value").text


@functools.cache
def functions_of_wizard():
    """Function -> (display name, compatibility name, description, category, {parameter: (name, description)})."""
    functions = {}
    for node in service_node().findall("node/node"):
        parameters = {p.get(OOR + "name"): (value(p, "DisplayName"), value(p, "Description"))
                      for p in node.findall(f"node[@{OOR}name='Parameters']/node")}
        functions[node.get(OOR + "name")] = (value(node, "DisplayName"), value(node, "CompatibilityName"),
                                             value(node, "Description"), value(node, "Category"), parameters)
    return functions


def parameter_texts(function, parameter):
    return functions_of_wizard()[function.removeprefix(SERVICE + ".")][4][parameter]
