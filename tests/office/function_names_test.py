"""Interfaces, component and wizard texts name the same functions and the same parameters."""

import re
import unittest

from function_names import FUNCTIONS, OOR, SERVICE, TOP, functions_of_component, functions_of_idl, functions_of_wizard
from function_names import service_node


class Names(unittest.TestCase):
    def test_all_three_name_the_same_functions(self):
        for functions in (functions_of_idl(), functions_of_component(), functions_of_wizard()):
            self.assertEqual(sorted(functions), sorted(FUNCTIONS))

    def test_all_three_name_the_same_parameters(self):
        for name in FUNCTIONS:
            with self.subTest(name):
                parameters = [parameter for parameter, _ in functions_of_idl()[name]]
                self.assertEqual(functions_of_component()[name], parameters)
                self.assertEqual(list(functions_of_wizard()[name][4]), parameters)

    def test_the_service_has_one_name_everywhere(self):
        self.assertEqual(service_node().get(OOR + "name"), SERVICE)
        self.assertIn(f'<service name="{SERVICE}"/>', (TOP / "extension/unply.components").read_text())
        self.assertIn(f'names[0] = "{SERVICE}";', (TOP / "extension/functions/sheet_functions.cpp").read_text())

    def test_shown_and_stored_names_are_the_same(self):
        for name, (display, compatibility, _, category, _) in functions_of_wizard().items():
            self.assertEqual((display, compatibility), (f"{SERVICE}.{name}", f"{SERVICE}.{name}"))
            self.assertEqual(category, "Statistical")

    def test_an_argument_has_the_same_name_in_the_wizard_and_in_the_sentences(self):
        words = (TOP / "extension/text/text_en_labels.cpp").read_text()
        body = re.search(r"std::string argument_name\(.*?\n}", words, flags=re.S).group()
        spoken = re.findall(r"case ArgumentId::(\w+): return \"([^\"]+)\";", body)
        spoken = {identifier.replace("_", ""): words for identifier, words in spoken}
        shown = {parameter: texts[0] for function in functions_of_wizard().values()
                 for parameter, texts in function[4].items()}
        for parameter, words in shown.items():
            self.assertEqual(spoken[parameter], words)


if __name__ == "__main__":
    unittest.main()
