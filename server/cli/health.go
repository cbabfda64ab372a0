package cli

import (
	"context"
	"fmt"
	"net/http"
	"time"

	"github.com/spf13/cobra"
)

// newHealth makes the command that a container asks whether its server answers:
// an image that holds nothing but the binary has no other client.
func newHealth() *cobra.Command {
	return &cobra.Command{
		Use:     "health URL",
		Short:   "Ask a running server whether it is well",
		Long:    "Ask a running server whether it is well. Exit status 0 when it answers so within three seconds, 2 when not.",
		Example: "  leeway health http://127.0.0.1:8321/healthz",
		Args:    cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			ctx, cancel := context.WithTimeout(cmd.Context(), 3*time.Second)
			defer cancel()
			req, err := http.NewRequestWithContext(ctx, http.MethodGet, args[0], nil)
			if err != nil {
				return err
			}
			resp, err := http.DefaultClient.Do(req)
			if err != nil {
				return err
			}
			defer resp.Body.Close()
			if resp.StatusCode != http.StatusOK {
				return fmt.Errorf("%s answers %s", args[0], resp.Status)
			}
			return nil
		},
	}
}
