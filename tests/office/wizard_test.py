"""The Function Wizard knows every sheet function with all of its texts, as the office hands them out."""

import unittest

from function_names import FUNCTIONS, functions_of_idl, parameter_texts
from office import OfficeTest, property_values


class Wizard(OfficeTest):
    def descriptions(self):
        service = self.office.service("com.sun.star.sheet.FunctionDescriptions")
        found = {}
        for name in service.ElementNames:
            if name.startswith("UNPLY."):
                found[name] = {value.Name: value.Value for value in service.getByName(name)}
        return found

    def test_every_function_is_there_and_no_other(self):
        self.assertEqual(sorted(self.descriptions()), sorted("UNPLY." + name for name in FUNCTIONS))

    def test_every_function_says_what_it_gives_and_what_to_put_in(self):
        for name, description in self.descriptions().items():
            with self.subTest(name):
                self.assertGreater(len(description["Description"]), 40)
                self.assertEqual(description["Category"], 8)  # com.sun.star.sheet.FunctionCategory.STATISTICAL
                parameters = functions_of_idl()[name.removeprefix("UNPLY.")]
                arguments = description["Arguments"]
                self.assertEqual([argument.Name for argument in arguments],
                                 [parameter_texts(name, parameter)[0] for parameter, _ in parameters])
                for argument, (parameter, kind) in zip(arguments, parameters):
                    self.assertEqual(argument.Description, parameter_texts(name, parameter)[1])
                    self.assertGreater(len(argument.Description), 20)
                    self.assertEqual(argument.IsOptional, kind == "any")


if __name__ == "__main__":
    unittest.main()
