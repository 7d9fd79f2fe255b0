using System.Text.Encodings.Web;
using System.Text.Json;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Pipeline.Definition;

/// <summary>The file of fitted coefficients that <c>learning.warmStart</c> names. Doubles are written so that reading gives the same bits.</summary>
public static class WarmStartFile
{
    private const string Kind = "streamlogit coefficients 1";

    private static readonly JsonWriterOptions Options = new()
    {
        Indented = true,
        NewLine = "\n",
        Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping,
    };

    /// <summary>Writes the file, as a whole or not at all.</summary>
    /// <exception cref="IOException">It cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">It may not be written.</exception>
    public static void Write(string path, FittedModel model)
    {
        string unfinished = path + ".unfinished";
        using (var stream = File.Create(unfinished))
        {
            using (var json = new Utf8JsonWriter(stream, Options)) Write(json, model);
            stream.WriteByte((byte)'\n');
        }
        File.Move(unfinished, path, overwrite: true);
    }

    /// <summary>Reads the file.</summary>
    /// <exception cref="IOException">It cannot be read.</exception>
    /// <exception cref="UnauthorizedAccessException">It may not be read.</exception>
    /// <exception cref="InvalidDataException">It is no such file, or damaged.</exception>
    public static FittedModel Read(string path)
    {
        try
        {
            using var document = JsonDocument.Parse(File.ReadAllBytes(path));
            var root = document.RootElement;
            if (root.ValueKind != JsonValueKind.Object || !root.TryGetProperty("kind", out var kind) || !kind.ValueEquals(Kind))
                throw new InvalidDataException("it was not written by streamlogit fit, or by another version of it");
            return new FittedModel
            {
                SlotMeaning = Text(root.GetProperty("slotMeaning")),
                Intercept = Finite(root.GetProperty("intercept")),
                Coefficients = [.. root.GetProperty("coefficients").EnumerateArray().Select(c => new FittedCoefficient(
                    c.GetProperty("slot").GetInt32(), Text(c.GetProperty("feature")), Finite(c.GetProperty("value"))))],
                Scales = [.. root.GetProperty("scales").EnumerateArray().Select(s => new FittedScale(
                    s.GetProperty("feature").GetInt32(), [.. s.GetProperty("learned").GetBytesFromBase64()]))],
            };
        }
        catch (Exception exception) when (exception is JsonException or KeyNotFoundException or InvalidOperationException or FormatException)
        {
            throw new InvalidDataException($"it is damaged: {exception.Message}", exception);
        }
    }

    private static void Write(Utf8JsonWriter json, FittedModel model)
    {
        json.WriteStartObject();
        json.WriteString("kind", Kind);
        json.WriteString("slotMeaning", model.SlotMeaning);
        json.WriteNumber("intercept", model.Intercept);
        json.WriteStartArray("coefficients");
        foreach (var (slot, feature, value) in model.Coefficients)
        {
            json.WriteStartObject();
            json.WriteNumber("slot", slot);
            json.WriteString("feature", feature);
            json.WriteNumber("value", value);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteStartArray("scales");
        foreach (var scale in model.Scales)
        {
            json.WriteStartObject();
            json.WriteNumber("feature", scale.Feature);
            json.WriteBase64String("learned", scale.Learned.AsSpan());
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteEndObject();
    }

    private static string Text(JsonElement element) => element.GetString() ?? throw new FormatException("a text is null");

    private static double Finite(JsonElement element) =>
        element.TryGetDouble(out double value) && double.IsFinite(value) ? value : throw new FormatException("a number is not finite");
}
