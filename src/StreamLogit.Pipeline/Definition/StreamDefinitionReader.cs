using System.Text;
using System.Text.Encodings.Web;
using System.Text.Json;
using StreamLogit.Pipeline.Definition.Sections;

namespace StreamLogit.Pipeline.Definition;

/// <summary>Reads stream definitions: JSON in which comments and trailing commas are allowed.</summary>
/// <remarks>
/// Every key is checked, unknown ones are refused, and nothing is clamped or left out. Overrides replace values before the check:
/// first environment variables, then arguments in their order, so that the last one counts.
/// </remarks>
public static class StreamDefinitionReader
{
    private const int MaximumBytes = 1 << 20;

    private static readonly JsonWriterOptions EffectiveOptions = new()
    {
        Indented = true,
        NewLine = "\n",
        Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping,
    };

    /// <summary>Reads a definition. Files it names without a root are relative to its folder.</summary>
    /// <param name="path">The file, at most 1 MiB.</param>
    /// <param name="overrides">Overrides written <c>path=value</c>, as <c>learning.bank[0].step=[0.01,0.03]</c>. The value is read as JSON, or else as a string.</param>
    /// <param name="environment">Environment variables; those named <c>STREAMLOGIT__path__part</c> are overrides.</param>
    /// <param name="use">What the definition is for.</param>
    /// <exception cref="DefinitionException">The definition cannot be used; all reasons are given.</exception>
    public static StreamDefinition ReadFile(
        string path,
        IReadOnlyList<string>? overrides = null,
        IReadOnlyDictionary<string, string>? environment = null,
        DefinitionUse use = DefinitionUse.Replay)
    {
        byte[] utf8;
        string folder;
        try
        {
            var file = new FileInfo(path);
            if (file.Exists && file.Length > MaximumBytes) throw Unreadable(path, $"has {file.Length} bytes; a definition has at most {MaximumBytes}");
            utf8 = File.ReadAllBytes(path);
            folder = Path.GetDirectoryName(file.FullName)!;
        }
        catch (Exception exception) when (exception is IOException or UnauthorizedAccessException or ArgumentException or NotSupportedException)
        {
            throw Unreadable(path, $"cannot be read: {exception.Message}");
        }
        return Read(utf8, path, folder, overrides, environment, use);
    }

    /// <summary>Reads a definition from UTF-8 text.</summary>
    /// <param name="utf8">The text.</param>
    /// <param name="name">What errors call it.</param>
    /// <param name="folder">The folder to which the files it names are relative.</param>
    /// <param name="overrides">As for <see cref="ReadFile"/>.</param>
    /// <param name="environment">As for <see cref="ReadFile"/>.</param>
    /// <param name="use">What the definition is for.</param>
    /// <exception cref="DefinitionException">The definition cannot be used; all reasons are given.</exception>
    public static StreamDefinition Read(
        byte[] utf8,
        string name,
        string folder,
        IReadOnlyList<string>? overrides = null,
        IReadOnlyDictionary<string, string>? environment = null,
        DefinitionUse use = DefinitionUse.Replay)
    {
        ArgumentNullException.ThrowIfNull(utf8);
        var errors = new DefinitionErrors();
        List<DefinitionOverride?> changes = [.. DefinitionOverride.FromEnvironment(environment ?? new Dictionary<string, string>(), errors)];
        foreach (string argument in overrides ?? []) changes.Add(DefinitionOverride.FromArgument(argument, errors));

        var root = PositionedJson.Parse(utf8, TextPlaces.OfFile(name, utf8), out var syntaxError);
        if (root is null) errors.Add(syntaxError!.Place, "", syntaxError.Message);
        errors.ThrowIfAny();

        foreach (var change in changes) root = OverriddenTree.With(root!, change!, errors);
        var definition = DefinitionSection.Read(new ValueReader(root!, "", errors), folder, use);
        errors.ThrowIfAny();
        return definition! with { EffectiveJson = EffectiveJson(root!) };
    }

    private static string EffectiveJson(PositionedValue root)
    {
        using var stream = new MemoryStream();
        using (var writer = new Utf8JsonWriter(stream, EffectiveOptions)) root.WriteTo(writer);
        return Encoding.UTF8.GetString(stream.GetBuffer(), 0, (int)stream.Length);
    }

    private static DefinitionException Unreadable(string path, string message) =>
        new([new DefinitionError(new DefinitionPlace(path), "", message)]);
}
