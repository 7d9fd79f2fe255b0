using System.Collections.Immutable;

namespace StreamLogit.Engine.Learning;

/// <summary>What became of the settings of a saved state when the definition's bank took it up.</summary>
/// <param name="Kept">Settings that go on where they were.</param>
/// <param name="Started">Settings that the state did not have. They start from the coefficients of the saved blend.</param>
/// <param name="Dropped">Settings of the state that the bank does not have any more.</param>
/// <param name="SavedPlaces">For each setting of the bank its place in the saved bank, or -1.</param>
public sealed record BankChange(
    ImmutableArray<string> Kept, ImmutableArray<string> Started, ImmutableArray<string> Dropped, ImmutableArray<int> SavedPlaces)
{
    /// <summary>Whether all settings are those of the state, at the same places.</summary>
    public bool IsNone => Started.IsEmpty && Dropped.IsEmpty && SavedPlaces.Select((saved, place) => saved == place).All(isSame => isSame);
}
