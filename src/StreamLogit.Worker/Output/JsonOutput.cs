using System.Text.Encodings.Web;
using System.Text.Json;

namespace StreamLogit.Worker.Output;

/// <summary>Writes one JSON value to standard output or to a file.</summary>
internal static class JsonOutput
{
    private static readonly JsonWriterOptions Options = new()
    {
        Indented = true,
        NewLine = "\n",
        // Names from the data stay readable; the result is no HTML.
        Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping,
    };

    /// <summary>Writes what <paramref name="write"/> writes, and a line end.</summary>
    public static void Write(Action<Utf8JsonWriter> write)
    {
        using var output = Console.OpenStandardOutput();
        using (var json = new Utf8JsonWriter(output, Options)) write(json);
        output.WriteByte((byte)'\n');
    }

    /// <summary>Writes what <paramref name="write"/> writes, and a line end, to a file in place of what it held.</summary>
    public static void WriteFile(string path, Action<Utf8JsonWriter> write)
    {
        using var output = File.Create(path);
        using (var json = new Utf8JsonWriter(output, Options)) write(json);
        output.WriteByte((byte)'\n');
    }

    /// <summary>A figure, or null where there is none.</summary>
    public static void WriteFigure(this Utf8JsonWriter json, string name, double value)
    {
        if (double.IsFinite(value)) json.WriteNumber(name, value);
        else json.WriteNull(name);
    }
}
