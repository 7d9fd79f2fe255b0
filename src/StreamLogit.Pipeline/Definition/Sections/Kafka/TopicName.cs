namespace StreamLogit.Pipeline.Definition.Sections.Kafka;

/// <summary>The name of a topic: letters, digits, dots, underscores and dashes, 249 at most.</summary>
internal static class TopicName
{
    private const int MostCharacters = 249;

    /// <summary>The name, or null and an error.</summary>
    public static string? Read(ValueReader value)
    {
        if (value.Text() is not { } name) return null;
        bool isRight = name.Length <= MostCharacters && name is not ("." or "..")
            && name.All(character => char.IsAsciiLetterOrDigit(character) || character is '.' or '_' or '-');
        if (isRight) return name;
        value.Error($"expected the name of a topic: letters, digits, dots, underscores and dashes, at most {MostCharacters} of them, found {value.Value.Describe()}");
        return null;
    }
}
