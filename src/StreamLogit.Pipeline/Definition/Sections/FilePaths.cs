namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary>The files that a definition names, relative to its folder, no two of them the same.</summary>
internal sealed class FilePaths(string folder)
{
    private readonly Dictionary<string, string> _keys = new(StringComparer.Ordinal);

    /// <summary>The full path, or null and an error.</summary>
    public string? Read(ValueReader? file)
    {
        if (file?.Text() is not { } text) return null;
        if (text.Contains('\0', StringComparison.Ordinal))
        {
            file.Error("the name of a file cannot hold the character NUL");
            return null;
        }
        string full = Path.GetFullPath(Path.Combine(folder, text));
        if (_keys.TryAdd(full, file.Path)) return full;
        file.Error($"is the same file as {_keys[full]}: name another");
        return null;
    }

    /// <summary>The full path of a file that is written, or null and an error.</summary>
    public string? ReadOutput(ValueReader? file)
    {
        if (file?.Value.Text != "-") return Read(file);
        file.Error("standard output cannot be taken up again where a run stopped: name a file");
        return null;
    }
}
