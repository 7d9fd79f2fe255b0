namespace StreamLogit.Worker;

/// <summary>Reads secrets, which stand in the environment or in a file of their own and never in a definition.</summary>
internal static class SecretText
{
    private const int LeastCharacters = 16;

    /// <summary>Reads the secret that a section of the definition names; null where it names none.</summary>
    /// <param name="what">What it is, as "access key of the page".</param>
    /// <param name="variable">The environment variable that holds it, or null.</param>
    /// <param name="variableKey">The key of the definition that names the variable.</param>
    /// <param name="file">The file that holds it, or null.</param>
    /// <param name="fileKey">The key of the definition that names the file.</param>
    /// <exception cref="WrongInputException">The secret is not there, or too short to protect anything. The message does not hold it.</exception>
    public static string? Read(string what, string? variable, string variableKey, string? file, string fileKey)
    {
        if (variable is not null)
        {
            string secret = Environment.GetEnvironmentVariable(variable)
                ?? throw new WrongInputException($"The environment variable {variable}, which {variableKey} names, is not set: it is to hold the {what}.");
            return Checked(what, secret, $"the environment variable {variable}");
        }
        if (file is null) return null;
        try
        {
            return Checked(what, File.ReadAllText(file), file);
        }
        catch (Exception exception) when (exception is IOException or UnauthorizedAccessException)
        {
            throw new WrongInputException($"The {what} cannot be read from the file that {fileKey} names: {exception.Message}");
        }
    }

    private static string Checked(string what, string text, string place)
    {
        string secret = text.TrimEnd('\r', '\n');
        if (secret.Length >= LeastCharacters && !secret.Any(char.IsWhiteSpace) && !secret.Any(char.IsControl)) return secret;
        throw new WrongInputException($"The {what} in {place} cannot be used: it is to have at least {LeastCharacters} characters, on one line and without blanks.");
    }
}
