using System.Collections.Immutable;

namespace StreamLogit.Engine.Learning;

/// <summary>How the rows and numbers of the settings of one rule lie in a saved state.</summary>
/// <param name="Rule">The name of the rule.</param>
/// <param name="RowLength">Places in a row of settings.</param>
/// <param name="RowsPerSlot">Rows that a slot has, of which the first holds the coefficients.</param>
/// <param name="NumbersPerSetting">Numbers of a setting, see <see cref="ILearner.NumbersPerSetting"/>.</param>
/// <param name="Settings">For each lane the setting's place in the bank and its name.</param>
internal sealed record GroupLayout(
    string Rule, int RowLength, int RowsPerSlot, int NumbersPerSetting, ImmutableArray<(int Place, string Name)> Settings);
