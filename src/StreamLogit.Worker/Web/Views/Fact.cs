namespace StreamLogit.Worker.Web.Views;

/// <summary>A figure that stands by itself.</summary>
/// <param name="Name">What it is.</param>
/// <param name="Value">The figure.</param>
/// <param name="Note">Its interval or what it is compared with.</param>
internal sealed record Fact(string Name, string Value, string Note);
