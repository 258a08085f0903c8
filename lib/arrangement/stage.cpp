// Keeps the target valid until the stage has its first source.
