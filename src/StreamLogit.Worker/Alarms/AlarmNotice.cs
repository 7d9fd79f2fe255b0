using System.Buffers;
using System.Text.Encodings.Web;
using System.Text.Json;
using StreamLogit.Engine.Health.Alarms;

namespace StreamLogit.Worker.Alarms;

/// <summary>A change of an alarm on its way to a webhook.</summary>
/// <param name="Stream">The stream.</param>
/// <param name="Change">The change.</param>
internal sealed record AlarmNotice(string Stream, AlarmChange Change)
{
    // What is sent is no HTML.
    private static readonly JsonWriterOptions Options = new() { Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping };

    /// <summary>The same for the same change, however often it is sent.</summary>
    public string Id => FormattableString.Invariant($"{Uri.EscapeDataString(Stream)}/{Change.Number}");

    /// <summary>What is sent, UTF-8.</summary>
    public byte[] ToJson()
    {
        var buffer = new ArrayBufferWriter<byte>();
        using (var json = new Utf8JsonWriter(buffer, Options))
        {
            json.WriteStartObject();
            json.WriteString("stream", Stream);
            json.WriteNumber("number", Change.Number);
            json.WriteString("alarm", Change.Name);
            json.WriteString("state", Change.IsRaised ? "raised" : "quiet");
            json.WriteString("at", DateTime.UnixEpoch.AddMicroseconds(Change.AtMicroseconds));
            if (double.IsFinite(Change.Value)) json.WriteNumber("value", Change.Value);
            else json.WriteNull("value");
            json.WriteString("sentence", Change.Sentence);
            json.WriteEndObject();
        }
        return buffer.WrittenSpan.ToArray();
    }
}
