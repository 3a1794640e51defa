package topology

import "context"

func (b *builder) addOpenLines(ctx context.Context) error { return nil }
