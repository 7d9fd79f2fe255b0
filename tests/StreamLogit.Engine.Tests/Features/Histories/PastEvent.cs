namespace StreamLogit.Engine.Tests.Features.Histories;

/// <summary>An event of a random stream.</summary>
/// <param name="Card">The key, or null where it is missing.</param>
/// <param name="Shop">A category, or null.</param>
/// <param name="Amount">A number, or null.</param>
/// <param name="Time">In microseconds.</param>
internal sealed record PastEvent(string? Card, string? Shop, double? Amount, long Time)
{
    /// <summary>Its label, where it is known.</summary>
    public (int Label, double Weight)? Known { get; set; }

    public string Json() => string.Create(
        System.Globalization.CultureInfo.InvariantCulture,
        $"{{\"id\":\"1\",\"time\":{Time / 1000m}{Text("card", Card)}{Text("shop", Shop)}{(Amount is null ? "" : $",\"amount\":{Amount:R}")}}}");

    private static string Text(string field, string? value) => value is null ? "" : $",\"{field}\":\"{value}\"";
}
